//! `abide completions` through the binary.

mod cli_support;

use cli_support::Desk;

#[test]
fn each_shell_gets_a_script_that_knows_commands_and_options() {
    for shell in ["bash", "zsh", "fish", "elvish", "powershell"] {
        let outcome = Desk::new().abide("completions").arg(shell).run().done().silent();
        for word in ["inspect", "follow", "survey", "draw", "completions", "energy-error"] {
            assert!(outcome.stdout.contains(word), "{word} for {shell}");
        }
    }
}

#[test]
fn an_unknown_shell_is_refused_with_the_known_ones() {
    let outcome = Desk::new().abide("completions").arg("tortoise").run().refused();
    outcome.said("bash").said("fish").said("zsh");
}

/// The script as its shell reads it: it is valid, and completes the commands.
#[test]
fn bash_completes_a_command() {
    let desk = Desk::new();
    desk.write("abide.bash", desk.abide("completions").arg("bash").run().done().stdout);
    let ask = "source ./abide.bash && COMP_WORDS=(abide sur) COMP_CWORD=1 && _abide abide sur abide && echo $COMPREPLY";
    let shell = std::process::Command::new("bash").args(["-c", ask]).current_dir(desk.path("")).output();
    let Ok(output) = shell else {
        eprintln!("there is no bash here; the script was not run");
        return;
    };
    assert_eq!(String::from_utf8(output.stdout).unwrap().trim(), "survey");
}

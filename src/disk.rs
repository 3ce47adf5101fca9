//! Files written so that nothing is lost: beside, then renamed.

//! stub until the branch lands
/// stub
#[derive(Clone, Copy, Debug)]
pub struct Elements;

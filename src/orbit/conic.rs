//! Where does a body move under an inverse-square pull or push?

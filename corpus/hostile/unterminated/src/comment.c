int before;
/* this comment has no end
int after;

#include "/etc/hostname"
#include "../../../../../../../../etc/hostname"
#include "/dev/zero"
#include </dev/stdin>

int out_of_reach;

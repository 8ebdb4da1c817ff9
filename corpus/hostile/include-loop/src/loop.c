#include "ping.h"
#include "self.h"

int ping_value = PING;

#define PING 1
#include "pong.h"

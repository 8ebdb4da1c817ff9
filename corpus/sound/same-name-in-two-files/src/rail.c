#include <stdint.h>

#define VREF_MV 5120u
#define STEPS   256u

uint8_t par8_read(void);

uint32_t rail_mv(void)
{
    return par8_read() * VREF_MV * 3u / STEPS;
}

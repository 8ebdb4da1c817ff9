#include <stdint.h>

uint16_t bip_read(void);

int32_t probe_mv(void)
{
    return (int32_t)bip_read() * 5000 / 2048;
}

#include <stdint.h>
uint16_t bip_read(void);

int16_t coil_ma(void)
{
    return (int16_t)bip_read() - 2048;
}

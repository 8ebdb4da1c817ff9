#include "gauge.h"

extern uint16_t adc_get(uint8_t input);

void gauge_init(struct gauge *self, uint16_t reference_mv)
{
    self->reference_mv = reference_mv;
    self->millivolts = 0;
}

void gauge_update(struct gauge *self)
{
    const struct gauge_type *type = self->type;
    uint32_t pin = adc_get(type->input) * (uint32_t)self->reference_mv;

    self->millivolts = (pin * type->times) >> type->bits;
}

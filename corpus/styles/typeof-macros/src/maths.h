#pragma once

#define smaller(a, b) ({ \
    __typeof__(a) first_ = (a); \
    __typeof__(b) second_ = (b); \
    first_ < second_ ? first_ : second_; })

#define div_closest(number, by) ({ \
    typeof(number) n_ = (number); \
    const typeof(by) by_ = (by); \
    __auto_type half_ = by_ / 2; \
    (n_ + half_) / by_; })

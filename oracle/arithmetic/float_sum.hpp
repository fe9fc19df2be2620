// The error of a float32 sum by the standard model (float_points.hpp). Private to this room.
#pragma once

namespace halflsb::float32 {

inline constexpr double unit = 0x1p-24, smallest = 0x1p-149;
// Second-order terms: below this of the first-order bound while n u < 2^-11 for sums of n terms.
inline constexpr double beyond_first_order = 1.0 + 0x1p-10;

/// The error of a sum: each term of `size` is rounded once as a product, unless it is fused, and once in every addition
/// from its own on.
class SumError {
public:
    explicit SumError(bool fused) : fused_(fused) {}

    void add_product(double size) { add(size, !fused_ || partial_ == 0.0); }
    void add_whole(double size) { add(size, false); }
    double value() const { return beyond_first_order * unit * error_ + static_cast<double>(2 * count_) * smallest; }
    int count() const { return count_; }

private:
    void add(double size, bool is_rounded) {
        if (size == 0.0) return;
        if (is_rounded) error_ += size;
        if (count_++ > 0) error_ += partial_ + size;
        partial_ += size;
    }

    bool fused_;
    double partial_ = 0.0, error_ = 0.0;
    int count_ = 0;
};

}  // namespace halflsb::float32

// Cross and power spectra kept apart in batches, so that the spread between them says how sure their sum is.
//
// Batches follow each other in time. Their number stays bounded: when all are full, each two neighbours become one
// (batch means with doubling batches; Law and Carson 1979 for the scheme). So a run of any length takes the same memory
// and always has at least `most / 2` batches to look at, once it has had as many.
#pragma once

#include <complex>
#include <cstddef>
#include <cstdint>
#include <span>
#include <vector>

namespace halflsb {

class BatchSums {
public:
    /// most: an even number, 4 or more. The spread of the 64 batches that there are at least is known to 9 %. Memory:
    /// most x points x 24 bytes, 6 MiB for the 2049 points of the longest segment.
    explicit BatchSums(std::size_t points, std::size_t most = 128);

    /// One more part (a segment, a pair of them, a realisation), all points of it. In order of time.
    void add(std::span<const std::complex<double>> cross, std::span<const double> power);

    std::size_t points() const { return points_; }
    /// Those begun, the last perhaps not full.
    std::size_t batches() const { return batches_; }
    std::int64_t parts() const { return parts_; }
    std::int64_t parts_a_batch() const { return parts_a_batch_; }
    std::complex<double> cross(std::size_t batch, std::size_t point) const { return cross_[batch * points_ + point]; }
    double power(std::size_t batch, std::size_t point) const { return power_[batch * points_ + point]; }

    /// Over all batches, in their order.
    struct Total {
        std::complex<double> cross;
        double power = 0.0;
        /// cross / power; NaN without power.
        std::complex<double> ratio() const;
    };
    Total total(std::size_t point) const;

private:
    void merge_neighbours();

    std::size_t points_, most_;
    std::size_t batches_ = 0;
    std::int64_t parts_ = 0, parts_a_batch_ = 1, parts_in_last_ = 0;
    std::vector<std::complex<double>> cross_;
    std::vector<double> power_;
};

}  // namespace halflsb

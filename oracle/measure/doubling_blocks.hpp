// Sums over consecutive blocks of a run of any length, in constant memory: when all blocks are full, each two
// neighbours become one, so that blocks double in length as the run grows (batch means with doubling batches; Law and
// Carson 1979 for the scheme). After the first `most` samples there are always more than most / 2 blocks, of one length
// but for the last; with 256 of them a run of 2^62 samples has blocks of 2^55.
//
// Where a block begins depends on the index alone, and its sums are compensated and in the order of the samples: any
// split of the run gives the same bits.
#pragma once

#include <algorithm>
#include <array>
#include <cstddef>
#include <cstdint>
#include <vector>

#include "oracle/measure/sums.hpp"

namespace halflsb {

template <std::size_t Sums>
class DoublingBlocks {
public:
    using Terms = std::array<double, Sums>;

    /// most: an even number, 2 or more. Memory: most x Sums x 16 bytes.
    explicit DoublingBlocks(std::size_t most = 256) : most_(most) {}

    /// The next `count` samples; term(i) gives what the i-th of them adds to each sum.
    template <class Term>
    void add(std::size_t count, Term term) {
        std::size_t done = 0;
        while (done < count) {
            if (blocks_.empty() || in_last_ == block_samples_) begin_block();
            const auto room = static_cast<std::uint64_t>(block_samples_ - in_last_);
            const auto fresh = static_cast<std::size_t>(std::min<std::uint64_t>(room, count - done));
            auto sums = blocks_.back();  // a local: the compiler cannot keep members in registers across the loads
            for (std::size_t i = done; i < done + fresh; ++i) {
                const Terms terms = term(i);
                for (std::size_t k = 0; k < Sums; ++k) sums[k].add(terms[k]);
            }
            blocks_.back() = sums;
            done += fresh;
            in_last_ += static_cast<std::int64_t>(fresh);
        }
    }

    std::size_t blocks() const { return blocks_.size(); }
    /// Of every block but the last, which may have fewer.
    std::int64_t block_samples() const { return block_samples_; }
    std::int64_t samples_in(std::size_t block) const { return block + 1 < blocks() ? block_samples_ : in_last_; }
    std::int64_t samples() const {
        return blocks_.empty() ? 0 : static_cast<std::int64_t>(blocks() - 1) * block_samples_ + in_last_;
    }
    double sum(std::size_t block, std::size_t which) const { return blocks_[block][which].value(); }
    /// Over all blocks, in their order.
    double sum(std::size_t which) const {
        CompensatedSum all;
        for (const auto& block : blocks_) all.add(block[which]);
        return all.value();
    }

private:
    void begin_block() {
        if (blocks_.size() == most_) {
            for (std::size_t block = 0; block < most_ / 2; ++block) {
                auto joined = blocks_[2 * block];
                for (std::size_t k = 0; k < Sums; ++k) joined[k].add(blocks_[2 * block + 1][k]);
                blocks_[block] = joined;
            }
            blocks_.resize(most_ / 2);
            block_samples_ *= 2;
        }
        blocks_.emplace_back();
        in_last_ = 0;
    }

    std::size_t most_;
    std::int64_t block_samples_ = 1, in_last_ = 0;
    std::vector<std::array<CompensatedSum, Sums>> blocks_;
};

}  // namespace halflsb

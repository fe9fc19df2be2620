// Stages one after the other. make_filter (filter.hpp) builds one.
#pragma once

#include <array>
#include <memory>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// An empty chain passes its input on.
class ChainFilter final : public Filter {
public:
    /// changes_rate: whether some stage does. No more than piece_inputs samples pass the stages at a time.
    explicit ChainFilter(std::vector<std::unique_ptr<Filter>> stages, bool changes_rate = false,
                         std::size_t piece_inputs = 1024);
    void reset() override;
    std::size_t outputs_for(std::size_t inputs) const override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    std::size_t process_piece(std::span<const double> from, std::span<double> out);

    std::vector<std::unique_ptr<Filter>> stages_;
    bool changes_rate_;
    std::size_t piece_inputs_;
    std::array<std::vector<double>, 2> between_;  ///< stages, in turn, where the rate changes
};

}  // namespace halflsb

// Stages one after the other. make_filter (filter.hpp) builds one.
#pragma once

#include <memory>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// An empty chain passes its input on.
class ChainFilter final : public Filter {
public:
    explicit ChainFilter(std::vector<std::unique_ptr<Filter>> stages);
    void reset() override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    std::vector<std::unique_ptr<Filter>> stages_;
};

}  // namespace halflsb

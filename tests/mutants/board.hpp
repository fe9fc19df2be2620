// A board: filters of each channel, how samples get to them and results back, and what goes wrong there in one line.
#pragma once

#include <memory>
#include <span>
#include <vector>

#include "stimuli/sample_format.hpp"
#include "tests/mutants/cores.hpp"

namespace halflsb::mutants {

class Board {
public:
    Board(std::vector<std::unique_ptr<Core>> cores, int word_bits, Fault fault);
    void power_up();
    void reset();
    /// Instants of a code a channel in; as many come back as the faults let.
    void process(std::span<const Code> in, std::vector<Code>& out);

private:
    void instant();
    Whole received(std::size_t channel) const;
    Whole before(std::size_t channel, Whole samples) const;
    void compute(std::vector<Whole>& results);
    void send(const std::vector<Whole>& results);

    std::vector<std::unique_ptr<Core>> cores_;
    int word_bits_;
    Fault fault_;
    Whole index_ = 0;
    std::vector<std::vector<Whole>> got_;  ///< of each channel all samples since the reset
    std::vector<Whole> sent_, held_;
    std::vector<Code>* out_ = nullptr;
};

}  // namespace halflsb::mutants

#include "oracle/arithmetic/every_word.hpp"

#include "oracle/filters/cic.hpp"

namespace halflsb {

DescribedChain with_every_word(DescribedChain chain) {
    for (DescribedStage& stage : chain.stages) {
        if (stage.accumulator_bits == wide_bits) stage.accumulator_bits = any_bits;
        const bool is_wrapping_cic =
            std::holds_alternative<CicDecimator>(stage.stage.design) && stage.state.overflow == Overflow::wrap;
        if (stage.state.bits == wide_bits && !is_wrapping_cic) stage.state.bits = any_bits;
        if (!stage.out.is_float && stage.out.word.bits == wide_bits) stage.out.word.bits = any_bits;
        if (!stage.in.is_float && stage.in.word.bits == wide_bits) stage.in.word.bits = any_bits;
    }
    return chain;
}

}  // namespace halflsb

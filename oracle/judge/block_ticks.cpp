#include "oracle/judge/block_ticks.hpp"

namespace halflsb {

SampleFormat format_of_ticks() { return *sample_format("i32"); }

std::vector<Code> codes_of_ticks(std::span<const BlockTicks> blocks) {
    std::vector<Code> codes;
    for (const BlockTicks& block : blocks) {
        codes.push_back(static_cast<Code>(block.samples));
        codes.push_back(static_cast<Code>(block.total));
        codes.push_back(static_cast<Code>(block.largest));
    }
    return codes;
}

std::vector<BlockTicks> ticks_of_codes(std::span<const Code> codes) {
    std::vector<BlockTicks> blocks;
    for (std::size_t i = 0; i + 2 < codes.size(); i += columns_of_ticks) {
        blocks.push_back(
            {codes[i], static_cast<std::uint32_t>(codes[i + 1]), static_cast<std::uint32_t>(codes[i + 2])});
    }
    return blocks;
}

}  // namespace halflsb

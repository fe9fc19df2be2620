#include "oracle/filters/channel_stages.hpp"

#include <algorithm>

namespace halflsb {

bool passes(const FilterStage& stage, int channel) {
    const std::vector<int>& list = stage.channels;
    return list.empty() || std::find(list.begin(), list.end(), channel) != list.end();
}

std::vector<std::size_t> stages_of_channel(const FilterChain& chain, int channel) {
    std::vector<std::size_t> passed;
    for (std::size_t i = 0; i < chain.size(); ++i) {
        if (passes(chain[i], channel)) passed.push_back(i);
    }
    return passed;
}

bool channels_differ(const FilterChain& chain) {
    return std::any_of(chain.begin(), chain.end(), [](const FilterStage& stage) { return !stage.channels.empty(); });
}

FilterChain chain_of_channel(const FilterChain& chain, int channel) {
    FilterChain own;
    for (const std::size_t i : stages_of_channel(chain, channel)) own.push_back(chain[i]);
    return own;
}

}  // namespace halflsb

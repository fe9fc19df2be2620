#include "runner/capture/recorder.hpp"

#include "stimuli/npy.hpp"

namespace halflsb {

Outcome<Recorder> Recorder::open(Files& files, const std::string& path, const SampleFormat& format, int channels) {
    auto file = files.open_output(path);
    if (!file) return file.error();
    Recorder recorder(std::move(*file), format, channels);
    // The length is not known yet; finish() writes the header again.
    const NpyHeaderBytes header = npy_header(npy_type_of(format), 0, channels);
    if (auto written = recorder.file_->write(header); !written) return written.error();
    return recorder;
}

Outcome<void> Recorder::append(std::span<const Code> codes) {
    bytes_.resize(codes.size() * bytes_of(npy_type_of(format_)));
    to_npy_bytes(format_, codes, bytes_);
    if (auto written = file_->write(bytes_); !written) return written;
    samples_ += static_cast<std::int64_t>(codes.size()) / channels_;
    return {};
}

Outcome<void> Recorder::read(std::int64_t first_index, std::span<Code> codes) {
    bytes_.resize(codes.size() * bytes_of(npy_type_of(format_)));
    const auto offset =
        npy_header_bytes + static_cast<std::size_t>(first_index * channels_) * bytes_of(npy_type_of(format_));
    if (auto got = file_->read_back(offset, bytes_); !got) return got;
    from_npy_bytes(format_, bytes_, codes);
    return {};
}

Outcome<void> Recorder::finish() {
    const NpyHeaderBytes header = npy_header(npy_type_of(format_), samples_, channels_);
    if (auto patched = file_->patch_start(header); !patched) return patched;
    return file_->commit();
}

void Recorder::discard() { file_->discard(); }

}  // namespace halflsb

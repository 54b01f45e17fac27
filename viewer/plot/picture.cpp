#include "viewer/plot/picture.h"

#include <cairo-pdf.h>
#include <cairo.h>

#include <cmath>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/case/carried.h"
#include "viewer/plot/cairo_canvas.h"
#include "viewer/plot/png_file.h"
#include "viewer/plot/svg_canvas.h"

namespace runband::plot {

namespace {

constexpr double kMmPerInch = 25.4, kPointsPerInch = 72;
constexpr int kMostPixels = 20000;
// PDF wants a date; a fixed one keeps the bytes the same from run to run.
constexpr const char* kFixedDate = "2000-01-01T00:00:00Z";

struct SurfaceCloser {
  void operator()(cairo_surface_t* s) const { cairo_surface_destroy(s); }
};
struct ContextCloser {
  void operator()(cairo_t* c) const { cairo_destroy(c); }
};
using Surface = std::unique_ptr<cairo_surface_t, SurfaceCloser>;
using Context = std::unique_ptr<cairo_t, ContextCloser>;

void require_good(cairo_status_t status) {
  if (status != CAIRO_STATUS_SUCCESS)
    throw FileError(ErrorCode::file_unwritable, std::string("picture: ") + cairo_status_to_string(status) + ".",
                    "choose a smaller size or dpi.");
}

void lay_ground(Canvas& canvas, const PictureOptions& options) {
  if (options.ground) canvas.polygon(corners(canvas.page()), *options.ground);
}

std::map<std::string, std::string> words_of(const PictureOptions& options) {
  std::map<std::string, std::string> words{{"Software", "Runband"}};
  if (!options.title.empty()) words["Title"] = options.title;
  if (!options.date.empty()) words["Creation Time"] = options.date;
  if (!options.case_text.empty()) words[kCarriedCaseKey] = options.case_text;
  return words;
}

Image image_of(cairo_surface_t* surface) {
  cairo_surface_flush(surface);
  Image image{cairo_image_surface_get_width(surface), cairo_image_surface_get_height(surface), {}};
  const int stride = cairo_image_surface_get_stride(surface);
  const unsigned char* bytes = cairo_image_surface_get_data(surface);
  image.rgba.reserve(static_cast<std::size_t>(image.width) * static_cast<std::size_t>(image.height) * 4);
  for (int j = 0; j < image.height; ++j) {
    const auto* row = reinterpret_cast<const std::uint32_t*>(bytes + static_cast<std::ptrdiff_t>(j) * stride);
    for (int i = 0; i < image.width; ++i) {
      const std::uint32_t a = row[i] >> 24;
      const auto part = [&](int shift) {
        const std::uint32_t v = (row[i] >> shift) & 0xFF;
        return static_cast<std::uint8_t>(a == 0 ? 0 : std::min<std::uint32_t>(255, (v * 255 + a / 2) / a));
      };
      image.rgba.insert(image.rgba.end(), {part(16), part(8), part(0), static_cast<std::uint8_t>(a)});
    }
  }
  return image;
}

bool is_opaque(const Image& image) {
  for (std::size_t i = 3; i < image.rgba.size(); i += 4)
    if (image.rgba[i] != 255) return false;
  return true;
}

}  // namespace

PictureKind picture_kind(const std::filesystem::path& path) {
  const std::string ending = path.extension().string();
  if (ending == ".png") return PictureKind::png;
  if (ending == ".svg") return PictureKind::svg;
  if (ending == ".pdf") return PictureKind::pdf;
  throw InputError(
      ErrorCode::bad_option,
      path.string() + ": " + (ending.empty() ? "no ending" : "\"" + ending + "\"") + " says no kind of picture.",
      "end the name with .png, .svg or .pdf.");
}

std::pair<int, int> pixels_of(const PictureOptions& options) {
  require_positive("picture", "width", options.width_mm, "mm");
  require_positive("picture", "height", options.height_mm, "mm");
  require_positive("picture", "dpi", options.dpi, "1/inch");
  const auto pixels = [&](double mm, const char* name) {
    const double count = std::round(mm / kMmPerInch * options.dpi);
    if (count < 1 || count > kMostPixels)
      throw out_of_range("picture", name, count, "pixels", "from 1 to " + std::to_string(kMostPixels));
    return static_cast<int>(count);
  };
  return {pixels(options.width_mm, "width"), pixels(options.height_mm, "height")};
}

std::string picture_bytes(PictureKind kind, const PictureOptions& options, const std::function<void(Canvas&)>& draw) {
  if (kind == PictureKind::png) {
    const auto [width, height] = pixels_of(options);
    const Surface surface(cairo_image_surface_create(CAIRO_FORMAT_ARGB32, width, height));
    require_good(cairo_surface_status(surface.get()));
    const Context context(cairo_create(surface.get()));
    const auto canvas =
        make_cairo_canvas(context.get(), options.width_mm, options.height_mm, options.dpi / kMmPerInch, true);
    // The last row and column may be a fraction of a pixel short of the page: the ground covers whole pixels.
    if (options.ground) canvas->polygon(corners(canvas->page().grown(1.0)), *options.ground);
    draw(*canvas);
    require_good(cairo_status(context.get()));
    const Image image = image_of(surface.get());
    return png_bytes(image, options.dpi, words_of(options), is_opaque(image));
  }
  require_positive("picture", "width", options.width_mm, "mm");
  require_positive("picture", "height", options.height_mm, "mm");
  if (kind == PictureKind::svg) {
    SvgCanvas canvas(options.width_mm, options.height_mm);
    lay_ground(canvas, options);
    draw(canvas);
    return canvas.bytes(options.title, options.case_text);
  }
  std::string bytes;
  const double to_points = kPointsPerInch / kMmPerInch;
  {
    const Surface surface(cairo_pdf_surface_create_for_stream(
        [](void* out, const unsigned char* data, unsigned size) {
          static_cast<std::string*>(out)->append(reinterpret_cast<const char*>(data), size);
          return CAIRO_STATUS_SUCCESS;
        },
        &bytes, options.width_mm * to_points, options.height_mm * to_points));
    require_good(cairo_surface_status(surface.get()));
    cairo_pdf_surface_set_metadata(surface.get(), CAIRO_PDF_METADATA_TITLE, options.title.c_str());
    cairo_pdf_surface_set_metadata(surface.get(), CAIRO_PDF_METADATA_CREATOR, "Runband");
    cairo_pdf_surface_set_metadata(surface.get(), CAIRO_PDF_METADATA_CREATE_DATE,
                                   options.date.empty() ? kFixedDate : options.date.c_str());
    if (!options.case_text.empty()) {
      const std::string carried = std::string(kCarriedCaseKey) + ":" + base64_encode(options.case_text);
      cairo_pdf_surface_set_metadata(surface.get(), CAIRO_PDF_METADATA_KEYWORDS, carried.c_str());
    }
    const Context context(cairo_create(surface.get()));
    const auto canvas = make_cairo_canvas(context.get(), options.width_mm, options.height_mm, to_points, false);
    lay_ground(*canvas, options);
    draw(*canvas);
    cairo_show_page(context.get());
    require_good(cairo_status(context.get()));
    cairo_surface_finish(surface.get());
    require_good(cairo_surface_status(surface.get()));
  }
  return bytes;
}

void write_picture(const std::filesystem::path& path, const PictureOptions& options,
                   const std::function<void(Canvas&)>& draw) {
  write_file(path, picture_bytes(picture_kind(path), options, draw));
}

std::string picture_over(Image under, const PictureOptions& options, const std::function<void(Canvas&)>& draw) {
  return picture_bytes(PictureKind::png, options, [&](Canvas& canvas) {
    canvas.image(canvas.page(), under, false);
    draw(canvas);
  });
}

}  // namespace runband::plot

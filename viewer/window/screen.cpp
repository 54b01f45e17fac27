#include "viewer/window/screen.h"

#include <backends/imgui_impl_opengl3.h>
#include <ft2build.h>
#include <imgui.h>
#include <imgui_freetype.h>
#include FT_FREETYPE_H

#include <algorithm>
#include <array>
#include <cmath>
#include <map>
#include <unordered_map>

#include "core/surface/cap.h"
#include "viewer/plot/fonts.h"
#include "viewer/window/gl.h"

namespace runband {

namespace {

constexpr double kForget_s = 4;  // a texture not drawn for so long is dropped
constexpr std::array<double, 4> kSizes{kLabelSize, kNoteSize, kBodySize, kTitleSize};

// Letters that the interface and its plots use; European and Cyrillic names of cases too.
constexpr ImWchar kLetters[] = {0x20,   0x17F,  0x391,  0x3C9,  0x400,  0x45F,  0x2009, 0x200A, 0x2010, 0x2015, 0x2018,
                                0x201E, 0x2020, 0x2026, 0x202F, 0x202F, 0x2032, 0x2033, 0x2070, 0x208E, 0x20AC, 0x20AC,
                                0x2190, 0x2195, 0x2202, 0x2202, 0x2206, 0x2207, 0x2211, 0x2212, 0x221A, 0x221A, 0x221E,
                                0x221E, 0x2248, 0x2248, 0x2260, 0x2265, 0x25A0, 0x25CF, 0x2713, 0x2713, 0};

std::uint64_t hash_of(const void* data, std::size_t bytes, std::uint64_t seed) {
  std::uint64_t h = 1469598103934665603ULL ^ seed;
  const auto* p = static_cast<const unsigned char*>(data);
  std::size_t i = 0;
  for (; i + 8 <= bytes; i += 8) {
    std::uint64_t word = 0;
    std::memcpy(&word, p + i, 8);
    h = (h ^ word) * 0x9E3779B97F4A7C15ULL;
    h ^= h >> 29;
  }
  for (; i < bytes; ++i) h = (h ^ p[i]) * 1099511628211ULL;
  return h;
}

}  // namespace

struct Screen::Baked {
  struct One {
    double em = 13;
    bool strong = false;
    ImFont* font = nullptr;
  };
  std::vector<One> fonts;
};

struct Screen::Cache {
  struct Texture {
    unsigned int name = 0;
    double drawn_at = 0;
  };
  struct Filling {
    std::vector<int> triangles;
    double drawn_at = 0;
  };
  std::unordered_map<std::uint64_t, Texture> textures;
  std::unordered_map<std::uint64_t, Filling> fillings;
};

Screen::Screen(Host& host) : host_(host), baked_(std::make_unique<Baked>()), cache_(std::make_unique<Cache>()) {
  IMGUI_CHECKVERSION();
  ImGuiContext* context = ImGui::CreateContext();
  context_ = context;
  ImGui::SetCurrentContext(context);
  ImGuiIO& io = ImGui::GetIO();
  io.IniFilename = nullptr;
  io.LogFilename = nullptr;
  io.BackendPlatformName = "runband";
  io.BackendFlags |= ImGuiBackendFlags_HasMouseCursors;
  io.ConfigWindowsMoveFromTitleBarOnly = true;
  io.ConfigInputTextCursorBlink = false;
  io.UserData = this;
#if IMGUI_VERSION_NUM < 18700
  const std::pair<ImGuiKey, Key> keys[] = {{ImGuiKey_Tab, Key::tab},
                                           {ImGuiKey_LeftArrow, Key::left},
                                           {ImGuiKey_RightArrow, Key::right},
                                           {ImGuiKey_UpArrow, Key::up},
                                           {ImGuiKey_DownArrow, Key::down},
                                           {ImGuiKey_PageUp, Key::page_up},
                                           {ImGuiKey_PageDown, Key::page_down},
                                           {ImGuiKey_Home, Key::home},
                                           {ImGuiKey_End, Key::end},
                                           {ImGuiKey_Insert, Key::insert},
                                           {ImGuiKey_Delete, Key::erase},
                                           {ImGuiKey_Backspace, Key::backspace},
                                           {ImGuiKey_Space, Key::space},
                                           {ImGuiKey_Enter, Key::enter},
                                           {ImGuiKey_Escape, Key::escape},
                                           {ImGuiKey_A, Key::a},
                                           {ImGuiKey_C, Key::c},
                                           {ImGuiKey_V, Key::v},
                                           {ImGuiKey_X, Key::x},
                                           {ImGuiKey_Y, Key::y},
                                           {ImGuiKey_Z, Key::z}};
  for (const auto& [theirs, ours] : keys) io.KeyMap[theirs] = static_cast<int>(ours);
#endif
  io.SetClipboardTextFn = [](void* self, const char* text) { static_cast<Screen*>(self)->host_.set_clipboard(text); };
  io.GetClipboardTextFn = [](void* self) {
    static thread_local std::string kept;
    kept = static_cast<Screen*>(self)->host_.clipboard();
    return kept.c_str();
  };
  io.ClipboardUserData = this;
  ImGui_ImplOpenGL3_Init("#version 330 core");
  last_ = host_.seconds();
}

Screen::~Screen() {
  ImGui::SetCurrentContext(static_cast<ImGuiContext*>(context_));
  for (const auto& [key, texture] : cache_->textures) gl::drop_texture(texture.name);
  ImGui_ImplOpenGL3_Shutdown();
  ImGui::DestroyContext(static_cast<ImGuiContext*>(context_));
}

void Screen::bake() {
  ImGuiIO& io = ImGui::GetIO();
  io.Fonts->Clear();
  io.Fonts->FontBuilderIO = ImGuiFreeType::GetBuilderForFreeType();
  io.Fonts->FontBuilderFlags = ImGuiFreeTypeBuilderFlags_LightHinting;
  io.Fonts->Flags |= ImFontAtlasFlags_NoMouseCursors;
  io.Fonts->TexDesiredWidth = scale_ > 1.4 ? 4096 : 2048;
  baked_->fonts.clear();
  const auto& fonts = plot::Fonts::shared();
  for (const bool strong : {false, true}) {
    for (const double size : kSizes) {
      if (strong && size == kNoteSize) continue;
      ImFont* font = nullptr;
      for (const plot::FontFile* file : fonts.chain(strong)) {
        ImFontConfig config;
        config.MergeMode = font != nullptr;
        config.OversampleH = config.OversampleV = 1;
        config.PixelSnapH = false;
        // The builder asks for the height from the lowest to the highest letter; we want so many pixels per em.
        const double height = static_cast<double>(file->face->ascender - file->face->descender) / file->units_per_em;
        const auto pixels = static_cast<float>(size * scale_ * height);
        ImFont* made = io.Fonts->AddFontFromFileTTF(file->path.c_str(), pixels, &config, kLetters);
        if (font == nullptr) font = made;
      }
      baked_->fonts.push_back({size * scale_, strong, font});
    }
  }
  io.Fonts->Build();
  for (const Baked::One& one : baked_->fonts)
    if (one.em == kBodySize * scale_ && !one.strong) io.FontDefault = one.font;
  ImGui_ImplOpenGL3_DestroyFontsTexture();
  ImGui_ImplOpenGL3_CreateFontsTexture();
}

ImFont* Screen::font(double size, bool strong) const {
  const Baked::One* best = nullptr;
  double least = 1e9;
  for (const Baked::One& one : baked_->fonts) {
    const double off = std::abs(one.em - size) + (one.strong != strong ? 0.75 * scale_ + 0.5 : 0.0);
    if (off < least) {
      least = off;
      best = &one;
    }
  }
  return best->font;
}

double Screen::em_of(const ImFont* font) const {
  for (const Baked::One& one : baked_->fonts)
    if (one.font == font) return one.em;
  return kBodySize * scale_;
}

bool Screen::typing() const { return ImGui::GetIO().WantTextInput; }

void Screen::apply(const Event& e) {
  ImGuiIO& io = ImGui::GetIO();
  if (e.kind != Event::Kind::move && e.kind != Event::Kind::leave) {
    io.KeyCtrl = e.modifiers.control;
    io.KeyShift = e.modifiers.shift;
    io.KeyAlt = e.modifiers.alt;
#if IMGUI_VERSION_NUM >= 18700
    io.AddKeyEvent(ImGuiMod_Ctrl, e.modifiers.control);
    io.AddKeyEvent(ImGuiMod_Shift, e.modifiers.shift);
    io.AddKeyEvent(ImGuiMod_Alt, e.modifiers.alt);
#endif
  }
  switch (e.kind) {
    case Event::Kind::move:
#if IMGUI_VERSION_NUM >= 18700
      io.AddMousePosEvent(static_cast<float>(e.x), static_cast<float>(e.y));
#else
      io.MousePos = {static_cast<float>(e.x), static_cast<float>(e.y)};
#endif
      break;
    case Event::Kind::leave:
#if IMGUI_VERSION_NUM >= 18700
      io.AddMousePosEvent(-FLT_MAX, -FLT_MAX);
#else
      io.MousePos = {-FLT_MAX, -FLT_MAX};
#endif
      break;
    case Event::Kind::button:
#if IMGUI_VERSION_NUM >= 18700
      io.AddMouseButtonEvent(static_cast<int>(e.button), e.down);
#else
      io.MouseDown[static_cast<int>(e.button)] = e.down;
#endif
      break;
    case Event::Kind::wheel:
#if IMGUI_VERSION_NUM >= 18700
      io.AddMouseWheelEvent(static_cast<float>(e.x), static_cast<float>(e.y));
#else
      io.MouseWheel += static_cast<float>(e.y);
      io.MouseWheelH += static_cast<float>(e.x);
#endif
      break;
    case Event::Kind::key:
      if (e.down) keys_.push_back(e);
#if IMGUI_VERSION_NUM >= 18700
      {
        static constexpr std::pair<Key, ImGuiKey> kNamed[] = {{Key::tab, ImGuiKey_Tab},
                                                              {Key::left, ImGuiKey_LeftArrow},
                                                              {Key::right, ImGuiKey_RightArrow},
                                                              {Key::up, ImGuiKey_UpArrow},
                                                              {Key::down, ImGuiKey_DownArrow},
                                                              {Key::home, ImGuiKey_Home},
                                                              {Key::end, ImGuiKey_End},
                                                              {Key::erase, ImGuiKey_Delete},
                                                              {Key::backspace, ImGuiKey_Backspace},
                                                              {Key::space, ImGuiKey_Space},
                                                              {Key::enter, ImGuiKey_Enter},
                                                              {Key::escape, ImGuiKey_Escape},
                                                              {Key::a, ImGuiKey_A},
                                                              {Key::c, ImGuiKey_C},
                                                              {Key::v, ImGuiKey_V},
                                                              {Key::x, ImGuiKey_X},
                                                              {Key::y, ImGuiKey_Y},
                                                              {Key::z, ImGuiKey_Z}};
        for (const auto& [ours, theirs] : kNamed)
          if (ours == e.key) io.AddKeyEvent(theirs, e.down);
      }
#else
      io.KeysDown[static_cast<int>(e.key)] = e.down;
#endif
      break;
    case Event::Kind::text:
      io.AddInputCharacter(static_cast<unsigned int>(e.letter));
      break;
    case Event::Kind::drop:
      dropped_.insert(dropped_.end(), e.files.begin(), e.files.end());
      break;
    case Event::Kind::close:
      close_asked_ = true;
      break;
  }
}

bool Screen::begin(std::vector<Event> events, const plot::Theme& theme) {
  ImGui::SetCurrentContext(static_cast<ImGuiContext*>(context_));
  for (Event& e : events) waiting_.push_back(std::move(e));
  keys_.clear();
  dropped_.clear();
  close_asked_ = false;
  width_ = host_.width_px();
  height_ = host_.height_px();
  if (width_ <= 0 || height_ <= 0) {
    // Nothing to draw on; what was asked meanwhile (to close, above all) is still heard.
    while (!waiting_.empty()) {
      if (waiting_.front().kind == Event::Kind::close) close_asked_ = true;
      waiting_.pop_front();
    }
    return false;
  }
  // A press or release ends the frame's share of events, and what follows a release or a wheel waits too.
  while (!waiting_.empty()) {
    const Event e = std::move(waiting_.front());
    waiting_.pop_front();
    apply(e);
    if (e.kind == Event::Kind::button || e.kind == Event::Kind::key || e.kind == Event::Kind::wheel ||
        e.kind == Event::Kind::drop)
      break;
  }
  if (host_.scale() != scale_) {
    scale_ = host_.scale();
    bake();
  }
  ground_ = theme.paper;
  ImGuiIO& io = ImGui::GetIO();
  io.DisplaySize = {static_cast<float>(width_), static_cast<float>(height_)};
  io.DisplayFramebufferScale = {1, 1};
  const double now = host_.seconds();
  io.DeltaTime = static_cast<float>(std::clamp(now - last_, 1e-4, 0.5));
  last_ = now;

  ImGuiStyle& style = ImGui::GetStyle();
  style = ImGuiStyle();
  const auto s = static_cast<float>(scale_);
  style.WindowPadding = style.FramePadding = style.ItemSpacing = style.ItemInnerSpacing = {0, 0};
  style.WindowBorderSize = style.ChildBorderSize = style.PopupBorderSize = style.FrameBorderSize = 0;
  style.WindowRounding = style.ChildRounding = style.PopupRounding = style.FrameRounding = 0;
  style.ScrollbarSize = 7 * s;
  style.ScrollbarRounding = 4 * s;
  style.WindowMinSize = {1, 1};
  style.AntiAliasedLinesUseTex = false;
  style.CircleTessellationMaxError = 0.15F;
  const auto colour = [](const plot::Colour& c, double opacity) {
    return ImVec4(static_cast<float>(c.r), static_cast<float>(c.g), static_cast<float>(c.b),
                  static_cast<float>(opacity));
  };
  for (ImVec4& each : style.Colors) each = {0, 0, 0, 0};
  style.Colors[ImGuiCol_Text] = colour(theme.ink, 1);
  style.Colors[ImGuiCol_TextDisabled] = colour(theme.quiet, 1);
  style.Colors[ImGuiCol_TextSelectedBg] = colour(theme.accent, 0.28);
  style.Colors[ImGuiCol_ScrollbarGrab] = colour(theme.steel, 0.35);
  style.Colors[ImGuiCol_ScrollbarGrabHovered] = colour(theme.steel, 0.6);
  style.Colors[ImGuiCol_ScrollbarGrabActive] = colour(theme.steel, 0.8);
  style.Colors[ImGuiCol_ModalWindowDimBg] = colour(theme.name == plot::ThemeName::dark ? theme.paper : theme.ink, 0.35);

  ImGui_ImplOpenGL3_NewFrame();
  ImGui::NewFrame();
  return true;
}

void Screen::end() {
  ImGui::Render();
  switch (ImGui::GetMouseCursor()) {
    case ImGuiMouseCursor_TextInput:
      host_.set_pointer(Pointer::text);
      break;
    case ImGuiMouseCursor_Hand:
      host_.set_pointer(Pointer::hand);
      break;
    case ImGuiMouseCursor_ResizeEW:
      host_.set_pointer(Pointer::resize_across);
      break;
    case ImGuiMouseCursor_ResizeNS:
      host_.set_pointer(Pointer::resize_down);
      break;
    default:
      host_.set_pointer(Pointer::arrow);
  }
  host_.begin_frame();
  gl::clear(ground_.r, ground_.g, ground_.b);
  ImGui_ImplOpenGL3_RenderDrawData(ImGui::GetDrawData());
  host_.end_frame();
  const double now = host_.seconds();
  std::erase_if(cache_->textures, [&](const auto& entry) {
    if (now - entry.second.drawn_at < kForget_s) return false;
    gl::drop_texture(entry.second.name);
    return true;
  });
  std::erase_if(cache_->fillings, [&](const auto& entry) { return now - entry.second.drawn_at >= kForget_s; });
}

unsigned int Screen::texture(const plot::Image& image, bool smooth) {
  const std::uint64_t key =
      hash_of(image.rgba.data(), image.rgba.size(), static_cast<std::uint64_t>(image.width) * 2 + (smooth ? 1 : 0));
  Cache::Texture& texture = cache_->textures[key];
  if (texture.name == 0) texture.name = gl::make_texture(image.width, image.height, image.rgba.data(), smooth);
  texture.drawn_at = host_.seconds();
  return texture.name;
}

const std::vector<int>& Screen::filled(std::span<const plot::Point> outline) {
  // Relative to the first point: a shape that moves is not filled again.
  std::vector<plot::Point> relative(outline.begin(), outline.end());
  const plot::Point first = relative.empty() ? plot::Point{} : relative.front();
  for (plot::Point& p : relative) p = {std::round((p.x - first.x) * 64) / 64, std::round((p.y - first.y) * 64) / 64};
  const std::uint64_t key = hash_of(relative.data(), relative.size() * sizeof(plot::Point), 7);
  const auto found = cache_->fillings.find(key);
  if (found != cache_->fillings.end()) {
    found->second.drawn_at = host_.seconds();
    return found->second.triangles;
  }
  Cache::Filling& filling = cache_->fillings[key];
  filling.drawn_at = host_.seconds();
  // Points that repeat would be taken for a crossing.
  Outline clean;
  std::vector<int> at;
  for (std::size_t i = 0; i < relative.size(); ++i) {
    const Vec2 p{relative[i].x, -relative[i].y};
    if (!clean.empty() && (p - clean.back()).norm() < 1e-6) continue;
    clean.push_back(p);
    at.push_back(static_cast<int>(i));
  }
  while (clean.size() > 1 && (clean.front() - clean.back()).norm() < 1e-6) {
    clean.pop_back();
    at.pop_back();
  }
  if (clean.size() < 3) return filling.triangles;
  try {
    for (const auto& t : fill_outline(clean, "outline"))
      for (const int k : t) filling.triangles.push_back(at[static_cast<std::size_t>(k)]);
  } catch (const std::exception&) {
    // A shape that crosses itself is drawn as a fan: near enough for a frame.
    for (std::size_t i = 1; i + 1 < at.size(); ++i)
      filling.triangles.insert(filling.triangles.end(), {at[0], at[i], at[i + 1]});
  }
  return filling.triangles;
}

}  // namespace runband

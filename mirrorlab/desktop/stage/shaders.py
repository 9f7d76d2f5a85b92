"""Shader sources of the OpenGL view: faces under a soft light, and lines as ribbons of even width."""

from __future__ import annotations

from mirrorlab.drawing.shading import HALFWAY, LIGHT, RIM_POWER, SHEEN_POWER, TURN_SHADE


def _vec(values: object) -> str:
    return "vec3({:.6f}, {:.6f}, {:.6f})".format(*values)  # type: ignore[misc]


FACE_VERTEX = """
uniform mat4 u_view;
uniform mat4 u_projection;
IN vec3 a_position;
IN vec3 a_normal;
IN vec4 a_color;
IN float a_ball;
OUT vec3 v_normal;
OUT vec3 v_place;
OUT vec4 v_color;
OUT float v_ball;
void main() {
    vec4 place = u_view * vec4(a_position, 1.0);
    v_place = place.xyz;
    v_normal = mat3(u_view[0].xyz, u_view[1].xyz, u_view[2].xyz) * a_normal;
    v_color = a_color;
    v_ball = a_ball;
    gl_Position = u_projection * place;
}
"""

FACE_FRAGMENT = f"""
uniform vec3 u_shade;
uniform vec3 u_sheen;
uniform float u_shade_alpha;
uniform float u_sheen_alpha;
uniform float u_parallel;
VARY vec3 v_normal;
VARY vec3 v_place;
VARY vec4 v_color;
VARY float v_ball;
void main() {{
    vec3 normal = normalize(v_normal);
    vec3 to_eye = mix(normalize(-v_place), vec3(0.0, 0.0, 1.0), u_parallel);
    float facing = dot(normal, to_eye);
    float shade;
    float sheen = 0.0;
    if (v_ball > 0.5) {{
        shade = u_shade_alpha * pow(1.0 - clamp(facing, 0.0, 1.0), {RIM_POWER:.3f});
        sheen = u_sheen_alpha * pow(max(dot(normal, {_vec(HALFWAY)}), 0.0), {SHEEN_POWER:.3f});
    }} else {{
        if (facing < 0.0) normal = -normal;
        shade = {TURN_SHADE:.3f} * u_shade_alpha * (0.5 - 0.5 * dot(normal, {_vec(LIGHT)}));
    }}
    vec3 color = mix(v_color.rgb, u_shade, shade);
    FRAG = vec4(mix(color, u_sheen, sheen), v_color.a);
}}
"""

LINE_VERTEX = """
uniform mat4 u_view;
uniform mat4 u_projection;
uniform vec2 u_half;      // half the picture, in pixels
uniform float u_lift;     // towards the eye, in the drawing's unit
uniform float u_scale;    // device pixels a pixel
uniform float u_depth;    // of the target, from the eye
uniform float u_far_alpha;
IN vec3 a_start;
IN vec3 a_end;
IN vec2 a_corner;         // 0 or 1 along, -1 or 1 across
IN vec2 a_width;
IN vec4 a_color;
OUT vec4 v_color;
OUT float v_across;
OUT float v_reach;
vec4 lifted(vec3 p) {
    vec4 place = u_view * vec4(p, 1.0);
    place.xyz -= u_lift * normalize(place.xyz);
    return u_projection * place;
}
void main() {
    vec4 start = lifted(a_start);
    vec4 end = lifted(a_end);
    vec2 from = start.xy / start.w * u_half;
    vec2 to = end.xy / end.w * u_half;
    vec2 along = to - from;
    float size = length(along);
    along = size > 1e-5 ? along / size : vec2(1.0, 0.0);
    float reach = 0.5 * a_width.x * u_scale;
    float outer = reach + 1.0;
    vec4 here = a_corner.x > 0.5 ? end : start;
    vec2 shift = a_corner.y * outer * vec2(-along.y, along.x) + (2.0 * a_corner.x - 1.0) * 0.5 * along;
    v_color = a_color;
    float far = step((u_view * vec4(0.5 * (a_start + a_end), 1.0)).z, -u_depth);
    v_color.a *= mix(1.0, u_far_alpha, far);
    v_across = a_corner.y * outer;
    v_reach = reach;
    gl_Position = vec4(here.xy + shift / u_half * here.w, here.zw);
}
"""

LINE_FRAGMENT = """
uniform float u_alpha;
VARY vec4 v_color;
VARY float v_across;
VARY float v_reach;
void main() {
    float cover = clamp(v_reach + 0.5 - abs(v_across), 0.0, 1.0) * min(1.0, 2.0 * v_reach + 0.2);
    FRAG = vec4(v_color.rgb, v_color.a * cover * u_alpha);
}
"""


def sources(vertex: str, fragment: str, version: tuple[int, int], embedded: bool) -> tuple[str, str]:
    """The two sources in the dialect of a context."""
    modern = version >= (3, 0) if embedded else version >= (3, 1)
    head = ""
    if modern:
        head = "#version 300 es\n" if embedded else "#version 140\n"
    elif not embedded:
        head = "#version 120\n"
    precision = "precision highp float;\n" if embedded else ""
    words_vertex = {"IN ": "in " if modern else "attribute ", "OUT ": "out " if modern else "varying "}
    words_fragment = {"VARY ": "in " if modern else "varying "}
    for word, meant in words_vertex.items():
        vertex = vertex.replace(word, meant)
    for word, meant in words_fragment.items():
        fragment = fragment.replace(word, meant)
    if modern:
        fragment = "out vec4 o_color;\n" + fragment.replace("FRAG =", "o_color =")
    else:
        fragment = fragment.replace("FRAG =", "gl_FragColor =")
    return head + precision + vertex, head + precision + fragment

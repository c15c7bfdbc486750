using System.Globalization;
using System.Net;
using System.Text;

namespace Pipeline.Reports;

/// <summary>A figure of panels that share their x axis, as an SVG element. Colours and dashes are classes of the page's style sheet, so
/// that print and screen may differ.</summary>
sealed class SvgFigure
{
    const double Width = 900, Left = 74, Right = 16, Foot = 44, Gap = 14;
    readonly StringBuilder _body = new();
    readonly (double Low, double High) _range;
    readonly string _xLabel, _title;
    double _top = 10;
    Axis _x, _y;

    /// <param name="title">What the figure shows, for readers that hear the page.</param>
    /// <param name="range">Of x.</param>
    /// <param name="xLabel">With unit.</param>
    public SvgFigure(string title, (double Low, double High) range, string xLabel)
    {
        (_title, _range, _xLabel) = (title, range, xLabel);
        _x = new Axis(range.Low, range.High, Left, Width - Right);
    }

    /// <summary>A panel below the last one; what is drawn next goes there.</summary>
    public SvgFigure Panel(double height, (double Low, double High) range, string label, bool last)
    {
        double bottom = _top + height;
        _y = new Axis(range.Low, range.High, bottom, _top);
        Tag($"<rect class=\"frame\" x=\"{F(Left)}\" y=\"{F(_top)}\" width=\"{F(Width - Left - Right)}\" height=\"{F(height)}\"/>");
        foreach (double tick in _y.Ticks(height > 160 ? 6 : 3))
        {
            Tag($"<line class=\"grid\" x1=\"{F(Left)}\" x2=\"{F(Width - Right)}\" y1=\"{F(_y.At(tick))}\" y2=\"{F(_y.At(tick))}\"/>");
            Tag($"<text class=\"tick end\" x=\"{F(Left - 7)}\" y=\"{F(_y.At(tick) + 4)}\">{Number(tick)}</text>");
        }
        foreach (double tick in _x.Ticks(9))
        {
            Tag($"<line class=\"grid\" x1=\"{F(_x.At(tick))}\" x2=\"{F(_x.At(tick))}\" y1=\"{F(_top)}\" y2=\"{F(bottom)}\"/>");
            if (last) Tag($"<text class=\"tick mid\" x=\"{F(_x.At(tick))}\" y=\"{F(bottom + 17)}\">{Number(tick)}</text>");
        }
        if (range.Low < 0 && range.High > 0) Tag($"<line class=\"zero\" x1=\"{F(Left)}\" x2=\"{F(Width - Right)}\" y1=\"{F(_y.At(0))}\" y2=\"{F(_y.At(0))}\"/>");
        Tag($"<text class=\"label mid\" transform=\"translate(17 {F(_top + 0.5 * height)}) rotate(-90)\">{Text(label)}</text>");
        if (last) Tag($"<text class=\"label mid\" x=\"{F(0.5 * (Left + Width - Right))}\" y=\"{F(bottom + 37)}\">{Text(_xLabel)}</text>");
        _top = bottom + (last ? Foot : Gap);
        return this;
    }

    /// <summary>Points with error bars; those outside x are left out.</summary>
    public SvgFigure Points(IReadOnlyList<double> xs, IReadOnlyList<double> ys, IReadOnlyList<double>? errors)
    {
        for (int i = 0; i < xs.Count; i++)
        {
            if (!Inside(xs[i]) || !double.IsFinite(ys[i])) continue;
            if (errors is not null)
                Tag($"<line class=\"error\" x1=\"{F(_x.At(xs[i]))}\" x2=\"{F(_x.At(xs[i]))}\" y1=\"{F(_y.At(ys[i] - errors[i]))}\" y2=\"{F(_y.At(ys[i] + errors[i]))}\"/>");
            Tag($"<circle class=\"point\" cx=\"{F(_x.At(xs[i]))}\" cy=\"{F(_y.At(ys[i]))}\" r=\"2.1\"/>");
        }
        return this;
    }

    /// <summary>A line through points; broken where a value is not finite.</summary>
    public SvgFigure Line(string style, IReadOnlyList<double> xs, IReadOnlyList<double> ys)
    {
        var path = new StringBuilder();
        bool pen = false;
        for (int i = 0; i < xs.Count; i++)
        {
            bool draw = Inside(xs[i]) && double.IsFinite(ys[i]);
            if (draw) path.Append(CultureInfo.InvariantCulture, $"{(pen ? 'L' : 'M')}{F(_x.At(xs[i]))} {F(_y.At(ys[i]))}");
            pen = draw;
        }
        return Path(style, path);
    }

    /// <summary>A histogram outline.</summary>
    /// <param name="style">Class.</param>
    /// <param name="edges">[n + 1].</param>
    /// <param name="values">[n].</param>
    public SvgFigure Steps(string style, IReadOnlyList<double> edges, IReadOnlyList<double> values)
    {
        var path = new StringBuilder();
        for (int i = 0; i < values.Count; i++)
            path.Append(CultureInfo.InvariantCulture, $"{(i == 0 ? 'M' : 'L')}{F(_x.At(edges[i]))} {F(_y.At(values[i]))}L{F(_x.At(edges[i + 1]))} {F(_y.At(values[i]))}");
        return Path(style, path);
    }

    /// <summary>The area between two histograms.</summary>
    public SvgFigure Band(string style, IReadOnlyList<double> edges, IReadOnlyList<double> low, IReadOnlyList<double> high)
    {
        var path = new StringBuilder();
        for (int i = 0; i < low.Count; i++)
            path.Append(CultureInfo.InvariantCulture, $"{(i == 0 ? 'M' : 'L')}{F(_x.At(edges[i]))} {F(_y.At(high[i]))}L{F(_x.At(edges[i + 1]))} {F(_y.At(high[i]))}");
        for (int i = low.Count - 1; i >= 0; i--)
            path.Append(CultureInfo.InvariantCulture, $"L{F(_x.At(edges[i + 1]))} {F(_y.At(low[i]))}L{F(_x.At(edges[i]))} {F(_y.At(low[i]))}");
        return Path(style, path.Append('Z'));
    }

    /// <summary>A vertical mark with a word.</summary>
    public SvgFigure Mark(double x, string word)
    {
        if (!Inside(x)) return this;
        Tag($"<line class=\"mark\" x1=\"{F(_x.At(x))}\" x2=\"{F(_x.At(x))}\" y1=\"{F(_y.To)}\" y2=\"{F(_y.From)}\"/>");
        Tag($"<text class=\"tick\" x=\"{F(_x.At(x) + 5)}\" y=\"{F(_y.To + 14)}\">{Text(word)}</text>");
        return this;
    }

    public Markup Draw() => new(string.Create(CultureInfo.InvariantCulture,
        $"<svg viewBox=\"0 0 {F(Width)} {F(_top)}\" role=\"img\" aria-label=\"{Text(_title)}\">{_body}</svg>"));

    bool Inside(double x) => x >= _range.Low && x <= _range.High;

    SvgFigure Path(string style, StringBuilder path)
    {
        if (path.Length > 1) Tag($"<path class=\"{style}\" d=\"{path.ToString()}\"/>");
        return this;
    }

    void Tag(FormattableString text) => _body.Append(text.ToString(CultureInfo.InvariantCulture));

    static string Text(string text) => WebUtility.HtmlEncode(text);

    static string F(double pixel) => pixel.ToString("0.#", CultureInfo.InvariantCulture);

    static string Number(double value) => (Math.Abs(value) < 1e-12 ? 0 : value).ToString("0.######", CultureInfo.InvariantCulture);
}

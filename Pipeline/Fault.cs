namespace Pipeline;

/// <summary>What is wrong with data or configuration, in the four parts a reader needs to mend it.</summary>
/// <param name="Where">File, and the row, column, dataset or key in it.</param>
/// <param name="Found">What stands there.</param>
/// <param name="Expected">What would have been accepted.</param>
/// <param name="Remedy">What to do.</param>
public sealed record Fault(string Where, string Found, string Expected, string Remedy)
{
    /// <summary>One line, the same on the console, in the report and in the result file.</summary>
    public override string ToString() => $"{Where}: found {Found}; expected {Expected}; {Remedy}";
}

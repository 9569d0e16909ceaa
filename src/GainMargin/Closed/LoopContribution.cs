namespace GainMargin;

/// <summary>
/// What one loop adds to the closed-loop matrices at its present gain, other loops left out: rows are the points driven,
/// columns the points sensed, <c>g·p·b·sᵀ</c> for stiffness and likewise for damping and mass; a residual flexibility that
/// the loop sees weakens it, <c>g·p/(1 + g·p·r)</c>.
/// </summary>
/// <param name="Stiffness">Added stiffness.</param>
/// <param name="Damping">Added damping.</param>
/// <param name="Mass">Added mass.</param>
/// <param name="IsCollocated">Whether sensor and actuator share one pattern.</param>
public sealed record LoopContribution(NamedMatrix Stiffness, NamedMatrix Damping, NamedMatrix Mass, bool IsCollocated);
